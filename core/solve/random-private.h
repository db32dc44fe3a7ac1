/* Random numbers whose sequence is the same on every machine and in every thread: SplitMix64 (Steele, Lea and Flood 2014). */
#ifndef BANDTALLY_RANDOM_PRIVATE_H
#define BANDTALLY_RANDOM_PRIVATE_H

#include <glib.h>
#include <math.h>

typedef struct
{
  guint64 state;
  double spare;
  gboolean has_spare;
} BtRandom;

static inline guint64
bt_random_mix (guint64 z)
{
  z = (z ^ (z >> 30)) * G_GUINT64_CONSTANT (0xbf58476d1ce4e5b9);
  z = (z ^ (z >> 27)) * G_GUINT64_CONSTANT (0x94d049bb133111eb);
  return z ^ (z >> 31);
}

/* @number: which of many independent sequences of one seed. */
static inline BtRandom
bt_random_new (guint64 seed, guint64 number)
{
  return (BtRandom){ .state = bt_random_mix (bt_random_mix (seed + G_GUINT64_CONSTANT (0x9e3779b97f4a7c15))
                                             ^ bt_random_mix (~number)) };
}

static inline guint64
bt_random_next (BtRandom *random)
{
  return bt_random_mix (random->state += G_GUINT64_CONSTANT (0x9e3779b97f4a7c15));
}

/* In (0, 1). */
static inline double
bt_random_uniform (BtRandom *random)
{
  return ((double)(bt_random_next (random) >> 12) + 0.5) * 0x1p-52;
}

/* Marsaglia's polar method (1964). */
static inline double
bt_random_normal (BtRandom *random)
{
  double u, v, s;

  if (random->has_spare)
    {
      random->has_spare = FALSE;
      return random->spare;
    }
  do
    {
      u = 2 * bt_random_uniform (random) - 1;
      v = 2 * bt_random_uniform (random) - 1;
      s = u * u + v * v;
    }
  while (s >= 1 || s == 0);
  s = sqrt (-2 * log (s) / s);
  random->spare = v * s;
  random->has_spare = TRUE;
  return u * s;
}

#endif
