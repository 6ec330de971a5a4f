/* How the loops over many numbers are compiled (as in limits, whose files are not for use here): for several instruction sets at once, of which the loader takes the
 * best that the processor has, where compiler and loader can do that. Elsewhere (clang, other processors, under a
 * sanitizer, whose checks run too late for the loader's choice) plainly. No relaxed arithmetic: every set gives the
 * same bits. The Makefile adds the flags that turn such loops into vector instructions. */
#ifndef BEAMWARD_HAZARD_VECTOR_H
#define BEAMWARD_HAZARD_VECTOR_H

#if defined(__GNUC__) && !defined(__clang__) && defined(__x86_64__) && defined(__gnu_linux__) &&                       \
    !defined(__SANITIZE_ADDRESS__) && !defined(__SANITIZE_THREAD__)
#if __GNUC__ >= 12
#define HAZARD_VECTOR __attribute__((target_clones("default", "avx2", "arch=x86-64-v4")))
#endif
#endif
#ifndef HAZARD_VECTOR
#define HAZARD_VECTOR
#endif

#endif
