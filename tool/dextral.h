/* Phrases on declarations as a macro, for code that keeps no comments:
 *
 *     DEXTRAL("in ned") Vector3d v;
 *
 * Under Clang it is an annotate attribute that dextral reads; under every other
 * compiler, in C and in C++, it is nothing. It never changes the program. */
#ifndef DEXTRAL_H
#define DEXTRAL_H

#if defined(__clang__)
#define DEXTRAL(phrase) __attribute__((annotate("dextral:" phrase)))
#else
#define DEXTRAL(phrase)
#endif

#endif /* DEXTRAL_H */
