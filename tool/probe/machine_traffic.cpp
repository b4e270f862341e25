// Bulk operations on memory, and what the caller of a run sees of it.
#include <algorithm>

#include "probe/machine_memory.h"

namespace dextral::probe::machine {

namespace {

constexpr std::uint8_t mark_read = 1, mark_written = 2;
constexpr std::size_t longest_text = 1 << 16;

}  // namespace

bool Memory::copy(Address to, Address from, std::uint64_t size) {
  Place source, target;
  if (size == 0) return true;
  if (!readable(from, size, source) || !writable(to, size, target)) return false;
  std::memmove(target.bytes, source.bytes, size);
  std::memmove(target.undefined, source.undefined, size);
  return true;
}

bool Memory::fill(Address to, const Slot& byte, std::uint64_t size) {
  Place target;
  if (size == 0) return true;
  if (!writable(to, size, target)) return false;
  std::memset(target.bytes, static_cast<int>(byte.bits & 0xff), size);
  std::memset(target.undefined, static_cast<int>(byte.undefined & 0xff), size);
  return true;
}

bool Memory::forget(Address at, std::uint64_t size) {
  Object* object = nullptr;
  if (!within(at, 0, "writes", object)) return false;
  if (object->origin != Origin::stack) return true;
  const std::uint64_t offset = offset_of(at);
  size = std::min(size, object->size - offset);
  std::memset(object->bytes + offset, 0, size);
  std::memset(object->undefined + offset, 0xff, size);
  return true;
}

bool Memory::text(Address at, std::string& text) {
  for (text.clear(); text.size() < longest_text; ++at) {
    Place place;
    if (!readable(at, 1, place)) return false;
    if (*place.undefined != 0) return fault_.raise(sentence(Cause::unset));
    if (*place.bytes == 0) return true;
    text += static_cast<char>(*place.bytes);
  }
  return fault_.raise("reads a text of more than " + std::to_string(longest_text) + " bytes");
}

Memory::Trace* Memory::trace_of(Object& object) {
  return const_cast<Trace*>(std::as_const(*this).trace_of(std::as_const(object)));
}

const Memory::Trace* Memory::trace_of(const Object& object) const {
  if (object.origin == Origin::given) return &traces_[object.extra];
  if (object.origin != Origin::global) return nullptr;
  const Global& global = globals_[object.extra];
  return global.traits.constant || !global.laid_out ? nullptr : &global.trace;
}

bool Memory::write_from_outside(Address at, std::span<const std::byte> bytes) {
  Object* object = nullptr;
  if (!within(at, bytes.size(), "writes", object) || !lay_out(at, object)) return false;
  if (bytes.empty()) return true;
  std::memcpy(object->bytes + offset_of(at), bytes.data(), bytes.size());
  std::memset(object->undefined + offset_of(at), 0, bytes.size());
  return true;
}

bool Memory::read_from_outside(Address at, std::size_t size, std::vector<std::byte>& bytes, Fault& fault) const {
  bytes.clear();
  const Object* object = lookup(at);
  if (object == nullptr || !object->live || object->origin == Origin::function)
    return fault.raise("reads through a wild pointer");
  const std::uint64_t offset = offset_of(at);
  if (offset > object->size || size > object->size - offset) return fault.raise("reads outside an object");
  if (size > 0 && object->bytes == nullptr) return fault.raise(sentence(Cause::unset));
  for (std::uint64_t i = offset; i < offset + size; ++i) {
    const Slot byte{object->bytes[i], object->undefined[i]};
    if (byte.undefined != 0) return fault.raise(sentence(cause_of(byte)));
    bytes.push_back(static_cast<std::byte>(byte.bits));
  }
  return true;
}

Machine::Traffic Memory::traffic(Address at) const {
  Machine::Traffic traffic;
  const Object* object = lookup(at);
  const Trace* trace = object != nullptr && object->live ? trace_of(*object) : nullptr;
  if (trace == nullptr) return traffic;
  for (std::uint8_t mark : trace->marks) {
    traffic.read.push_back((mark & mark_read) != 0);
    traffic.written.push_back((mark & mark_written) != 0);
  }
  return traffic;
}

std::map<std::string, Address> Memory::globals_read() const {
  std::map<std::string, Address> read;
  for (const Global& global : globals_)
    if (global.read) read[global.traits.symbol] = global.address;
  return read;
}

}  // namespace dextral::probe::machine
