/* What a fuzz target must give to be run by libFuzzer or by driver.c. */
#ifndef BANDTALLY_FUZZ_H
#define BANDTALLY_FUZZ_H

#include <stddef.h>
#include <stdint.h>

int LLVMFuzzerTestOneInput (const uint8_t *data, size_t size);

#endif
