"""The demo lots are what data/demo/make-demo makes: the same preamble, and values equal to the last printed place."""
import os
import pathlib
import subprocess
import sys
import tempfile

cli, demo = sys.argv[1], pathlib.Path(sys.argv[2])
failed = 0


def parts(path):
    lines = path.read_text(encoding='utf-8').splitlines()
    head = [line for line in lines if not line[0].isdigit()]
    rows = [tuple(map(float, line.split(','))) for line in lines if line[0].isdigit()]
    return head, rows


def same(made, kept):
    (head, rows), (kept_head, kept_rows) = parts(made), parts(kept)
    # One in the last place: mathematical libraries round differently.
    return (head == kept_head and len(rows) == len(kept_rows) and len(rows) > 100 and 'Invented data' in head[0]
            and all(a[0] == b[0] and abs(a[1] - b[1]) < 1.5e-5 for a, b in zip(rows, kept_rows)))


kept = sorted(demo.glob('*.csv'))
print(f'1..{len(kept) + 1}')
with tempfile.TemporaryDirectory() as folder:
    subprocess.run(['sh', str(demo / 'make-demo'), folder], check=True, env=dict(os.environ, BANDTALLY_CLI=cli))
    made = sorted(pathlib.Path(folder).glob('*.csv'))
    ok = [path.name for path in made] == [path.name for path in kept] and len(kept) == 10
    failed += not ok
    print(f'{"ok" if ok else "not ok"} 1 - ten films, none missing')
    for number, path in enumerate(kept, 2):
        other = pathlib.Path(folder) / path.name
        ok = other.exists() and same(other, path)
        failed += not ok
        print(f'{"ok" if ok else "not ok"} {number} - {path.name}')
sys.exit(1 if failed else 0)
