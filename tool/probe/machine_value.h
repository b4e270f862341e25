// Values as the machine holds them.
//
// A value of the IR is flattened into slots, one for each number or pointer in
// it. A slot knows which of its bits are undefined, as bytes that nobody wrote
// are, or the outcome of an addition that overflows. Such bits travel: through
// memory, calls and operations. The run ends only where they would decide
// something: a branch, an address, an outcome.
//
// Undefined bits are zero in `bits`, except that a value which is undefined as
// a whole keeps the cause there, for the person who reads why the run ended.
#pragma once

#include <bit>
#include <cstdint>
#include <cstring>
#include <map>
#include <memory>
#include <string>
#include <vector>

namespace llvm {
class DataLayout;
class Type;
}  // namespace llvm

namespace dextral::probe::machine {

struct Slot {
  std::uint64_t bits = 0;
  std::uint64_t undefined = 0;
};

enum class Cause : std::uint8_t { unset = 0, overflow = 1, shift = 3, conversion = 5, wild = 7 };

constexpr std::uint64_t ones(unsigned width) { return width >= 64 ? ~0ull : (1ull << width) - 1; }

constexpr Slot poison(unsigned width, Cause cause = Cause::unset) {
  const std::uint64_t bits = static_cast<std::uint64_t>(cause);
  return {(bits & ones(width)) == bits ? bits : 0, ones(width)};
}

inline Cause cause_of(const Slot& slot) {
  return (slot.bits & slot.undefined & 1) != 0 ? static_cast<Cause>(slot.bits & 7 & slot.undefined) : Cause::unset;
}

// "overflows a signed integer"
const char* sentence(Cause);

constexpr std::int64_t as_signed(std::uint64_t bits, unsigned width) {
  const unsigned rest = 64 - width;
  return width == 0 ? 0 : static_cast<std::int64_t>(bits << rest) >> rest;
}

inline double as_double(std::uint64_t bits) { return std::bit_cast<double>(bits); }
inline float as_float(std::uint64_t bits) { return std::bit_cast<float>(static_cast<std::uint32_t>(bits)); }
inline std::uint64_t bits_of(double value) { return std::bit_cast<std::uint64_t>(value); }
inline std::uint64_t bits_of(float value) { return std::bit_cast<std::uint32_t>(value); }

enum class Kind : std::uint8_t { integer, pointer, single_float, double_float };

// One number or pointer in a type.
struct Part {
  Kind kind = Kind::integer;
  std::uint8_t width = 0;  // in bits
  std::uint8_t bytes = 0;  // in memory
  std::uint32_t offset = 0;
};

struct Shape {
  std::vector<Part> parts;
  std::uint64_t bytes = 0;  // from one element of an array to the next
  std::string trouble;      // why the machine cannot hold it: "uses long double"
  bool unstorable = false;  // a vector of bits: lives in slots only
};

class Shapes {
 public:
  explicit Shapes(const llvm::DataLayout& layout) : layout_(layout) {}
  const Shape& of(llvm::Type*);

 private:
  void flatten(llvm::Type*, std::uint64_t offset, Shape&, unsigned depth);
  void flatten_scalar(llvm::Type*, std::uint64_t offset, Shape&);
  void flatten_integer(unsigned width, std::uint64_t offset, Shape&);

  const llvm::DataLayout& layout_;
  std::map<llvm::Type*, std::unique_ptr<Shape>> known_;
};

inline Slot get(const Part& part, const std::uint8_t* bytes, const std::uint8_t* undefined) {
  Slot slot;
  if (part.bytes == 8) {
    std::memcpy(&slot.bits, bytes, 8);
    std::memcpy(&slot.undefined, undefined, 8);
    if (part.width == 64) return slot;
  } else {
    std::memcpy(&slot.bits, bytes, part.bytes);
    std::memcpy(&slot.undefined, undefined, part.bytes);
  }
  slot.bits &= ones(part.width);
  slot.undefined &= ones(part.width);
  return slot;
}

inline void put(const Part& part, const Slot& slot, std::uint8_t* bytes, std::uint8_t* undefined) {
  if (part.bytes == 8) {
    std::memcpy(bytes, &slot.bits, 8);
    std::memcpy(undefined, &slot.undefined, 8);
  } else {
    std::memcpy(bytes, &slot.bits, part.bytes);
    std::memcpy(undefined, &slot.undefined, part.bytes);
  }
}

// Why the run ended. The first reason stays.
class Fault {
 public:
  bool raise(std::string why) {
    if (why_.empty()) why_ = std::move(why);
    return false;
  }
  const std::string& why() const { return why_; }
  void clear() { why_.clear(); }

 private:
  std::string why_;
};

}  // namespace dextral::probe::machine
