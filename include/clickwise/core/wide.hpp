// Hot loops built twice into one program: for every machine, and for those with vectors of 256 bits
// and fused multiply-add. The machine chooses when the program starts; results of the two differ by
// rounding only.
#pragma once

#if defined(__x86_64__) && defined(__GNUC__) && !defined(__clang__) && \
    !defined(__SANITIZE_ADDRESS__)
#define CLICKWISE_WIDE __attribute__((target_clones("arch=x86-64-v3", "default")))
#else
#define CLICKWISE_WIDE
#endif
