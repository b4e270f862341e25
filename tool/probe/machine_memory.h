// The bounded memory of the machine.
//
// Memory is a set of objects: one for each alloca, allocation, global, function
// and each object that the caller hands in. An address names its object and an
// offset into it, so that every access is checked against the one object that
// the pointer was made from:
//
//     63     52 51        32 31                0
//    | generation | object  | base + offset      |
//
// The base lies in the middle of its range: pointers may stray before or beyond
// their object, as one-based arrays need, and come back. A number of an object
// is used again after its release, under the next generation, so that pointers
// to what was released are known for what they are.
//
// Beside each byte stands a byte that says which of its bits are undefined.
#pragma once

#include <cstddef>
#include <deque>
#include <functional>
#include <map>
#include <optional>
#include <span>
#include <utility>

#include "probe/machine.h"
#include "probe/machine_value.h"

namespace dextral::probe::machine {

enum class Origin : std::uint8_t { stack, heap, given, global, function };

// Where the bytes of a checked access lie.
struct Place {
  std::uint8_t* bytes = nullptr;
  std::uint8_t* undefined = nullptr;
};

struct GlobalTraits {
  std::string name;  // for people
  std::string symbol;
  bool constant = false;
  bool guard = false;               // of a static of a function
  bool local = false;               // a static of a function
  std::function<void(Place)> fill;  // its first value, laid out at first use; none: unknown
};

class Memory {
 public:
  Memory(std::size_t bytes, Fault&);

  // A run begins: what earlier ones read and wrote is forgotten.
  void begin();
  // The bytes count from here.
  void recount();

  // Objects on the stack live until `pop` of an earlier mark.
  bool push(std::uint64_t size, Address&);
  std::size_t mark() const { return stack_.size(); }
  void pop(std::size_t mark);

  bool allocate(std::uint64_t size, Address&, Origin = Origin::heap);
  bool release(Address);
  bool size_of(Address, std::uint64_t& size);

  // Never refuse; an object too large to hold has an address and no bytes.
  Address place_global(std::uint64_t size, GlobalTraits);
  Address place_function(std::uint32_t number);
  std::optional<std::uint32_t> function_at(Address) const;

  bool readable(Address at, std::uint64_t size, Place& place) {
    const Object* object = lookup(at);
    const std::uint64_t offset = offset_of(at);
    if (object == nullptr || offset > object->open_read || size > object->open_read - offset)
      return readable_closely(at, size, place);
    place = {object->bytes + offset, object->undefined + offset};
    return true;
  }
  bool writable(Address at, std::uint64_t size, Place& place) {
    const Object* object = lookup(at);
    const std::uint64_t offset = offset_of(at);
    if (object == nullptr || offset > object->open_write || size > object->open_write - offset)
      return writable_closely(at, size, place);
    place = {object->bytes + offset, object->undefined + offset};
    return true;
  }

  bool load(Address at, const Part& part, Slot& to) {
    Place place;
    if (!readable(at, part.bytes, place)) return false;
    to = get(part, place.bytes, place.undefined);
    return true;
  }
  bool store(Address at, const Part& part, const Slot& from) {
    Place place;
    if (!writable(at, part.bytes, place)) return false;
    put(part, from, place.bytes, place.undefined);
    return true;
  }
  bool copy(Address to, Address from, std::uint64_t size);
  bool fill(Address to, const Slot& byte, std::uint64_t size);
  // The bytes lose their values.
  bool forget(Address at, std::uint64_t size);
  // A string up to its end, each byte defined.
  bool text(Address at, std::string&);

  // From outside a run: nothing is traced, and globals may be written.
  bool write_from_outside(Address, std::span<const std::byte>);
  bool read_from_outside(Address, std::size_t, std::vector<std::byte>&, Fault&) const;
  Machine::Traffic traffic(Address) const;
  std::map<std::string, Address> globals_read() const;

  // While statics of functions are being initialised, they may be written.
  void enter_guard() { ++guards_; }
  void leave_guard() { guards_ -= guards_ > 0 ? 1 : 0; }

  static constexpr std::uint64_t base = 1u << 30;
  static constexpr std::uint64_t largest = 1u << 30;

 private:
  struct Object {
    std::uint8_t* bytes = nullptr;
    std::uint8_t* undefined = nullptr;
    std::uint32_t open_read = 0;  // bytes that need no closer look
    std::uint32_t open_write = 0;
    std::uint32_t generation = 1;
    Origin origin = Origin::heap;
    bool live = false;
    std::uint64_t size = 0;
    std::uint32_t extra = 0;  // index of a global, a function or a trace
    std::unique_ptr<std::uint8_t[]> own;
  };

  struct Trace {
    std::vector<std::uint8_t> marks;
    bool touched = false;
  };

  struct Global {
    GlobalTraits traits;
    Address address = 0;
    Trace trace;
    bool laid_out = false;
    bool settled = false;  // holds what its initialisation at run time gave
    bool read = false;
  };

  static std::uint32_t number_of(Address at) { return at >> 32 & 0xfffff; }
  static std::uint64_t generation_of(Address at) { return at >> 52; }
  static std::uint64_t offset_of(Address at) { return (at & 0xffffffff) - base; }
  static Address address(std::uint32_t number, std::uint32_t generation) {
    return static_cast<Address>(generation) << 52 | static_cast<Address>(number) << 32 | base;
  }

  const Object* lookup(Address at) const {
    const std::uint32_t number = number_of(at);
    if (number >= objects_.size()) return nullptr;
    const Object& object = objects_[number];
    return object.generation == generation_of(at) ? &object : nullptr;
  }
  Object* lookup(Address at) { return const_cast<Object*>(std::as_const(*this).lookup(at)); }

  bool readable_closely(Address, std::uint64_t size, Place&);
  bool writable_closely(Address, std::uint64_t size, Place&);
  bool within(Address, std::uint64_t size, const char* verb, Object*&);
  bool read_global(Object&, std::uint64_t offset, std::uint64_t size);
  bool write_global(Object&);
  bool lay_out(Address, Object*&);
  Trace* trace_of(Object&);
  const Trace* trace_of(const Object&) const;

  bool reserve(std::uint64_t size);
  bool fresh(std::uint32_t& number);
  void retire(std::uint32_t number);
  void give_bytes(Object&, std::uint64_t size);
  static std::uint64_t cost(std::uint64_t size) { return (size + 31) & ~15ull; }

  Fault& fault_;
  const std::size_t bytes_;
  std::size_t live_ = 0;  // bytes of all objects but globals and functions
  std::size_t ceiling_ = 0;
  std::size_t laid_ = 0;  // bytes of globals
  unsigned guards_ = 0;
  std::vector<Object> objects_;
  std::vector<std::uint32_t> free_;
  std::vector<std::uint32_t> stack_;
  std::unique_ptr<std::uint8_t[]> arena_;  // of the stack: bytes, then undefined bits
  std::size_t top_ = 0;
  std::vector<Trace> traces_;
  std::deque<Global> globals_;  // stay in place while one is laid out
};

}  // namespace dextral::probe::machine
