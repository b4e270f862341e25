// Functions of numbers as functions of bits: the wrappers.
#pragma once

#include <cstdint>

#include "probe/machine_code.h"

namespace dextral::probe::machine {

template <typename T>
T number_of_bits(std::uint64_t bits) {
  if constexpr (sizeof(T) == 8)
    return as_double(bits);
  else
    return as_float(bits);
}

inline Slot slot_of(double value) { return {bits_of(value), 0}; }
inline Slot slot_of(float value) { return {bits_of(value), 0}; }
inline Slot slot_of(int value) { return {static_cast<std::uint32_t>(value), 0}; }
inline Slot slot_of(long value) { return {static_cast<std::uint64_t>(value), 0}; }
inline Slot slot_of(long long value) { return {static_cast<std::uint64_t>(value), 0}; }
inline Slot slot_of(bool value) { return {value, 0}; }
inline Slot slot_of(Slot slot) { return slot; }

// A function F of one, two or three numbers of type T.
template <typename T, typename F>
Slot one_number(unsigned, std::uint64_t a, std::uint64_t, std::uint64_t) {
  return slot_of(F{}(number_of_bits<T>(a)));
}
template <typename T, typename F>
Slot two_numbers(unsigned, std::uint64_t a, std::uint64_t b, std::uint64_t) {
  return slot_of(F{}(number_of_bits<T>(a), number_of_bits<T>(b)));
}
template <typename T, typename F>
Slot three_numbers(unsigned, std::uint64_t a, std::uint64_t b, std::uint64_t c) {
  return slot_of(F{}(number_of_bits<T>(a), number_of_bits<T>(b), number_of_bits<T>(c)));
}
// Of a number and an int.
template <typename T, typename F>
Slot number_and_int(unsigned, std::uint64_t a, std::uint64_t b, std::uint64_t) {
  return slot_of(F{}(number_of_bits<T>(a), static_cast<int>(static_cast<std::uint32_t>(b))));
}

}  // namespace dextral::probe::machine
