// Objects: their making, their release, and the accesses that need a closer look.
#include "probe/machine_memory.h"

#include <algorithm>

namespace dextral::probe::machine {

namespace {

constexpr std::size_t most_objects = 1 << 20;
constexpr std::uint32_t most_generations = 2047;
constexpr std::uint8_t mark_read = 1, mark_written = 2;
constexpr Address null_page = 4096;

}  // namespace

Memory::Memory(std::size_t bytes, Fault& fault)
    : fault_(fault), bytes_(std::min<std::size_t>(bytes, largest)), arena_(new std::uint8_t[2 * bytes_ + 2]) {
  objects_.resize(1);  // number 0 stays unused: null and small numbers
  recount();
}

void Memory::recount() { ceiling_ = std::min(live_ + bytes_, 4 * bytes_); }

void Memory::begin() {
  pop(0);
  recount();
  guards_ = 0;
  auto forget = [](Trace& trace) {
    if (trace.touched) std::fill(trace.marks.begin(), trace.marks.end(), 0);
    trace.touched = false;
  };
  std::for_each(traces_.begin(), traces_.end(), forget);
  for (Global& global : globals_) {
    forget(global.trace);
    global.read = false;
  }
}

bool Memory::reserve(std::uint64_t size) {
  if (size > largest || live_ + cost(size) > ceiling_)
    return fault_.raise("needs more than " + std::to_string(bytes_) + " bytes");
  return true;
}

bool Memory::fresh(std::uint32_t& number) {
  if (!free_.empty()) {
    number = free_.back();
    free_.pop_back();
    return true;
  }
  if (objects_.size() >= most_objects)
    return fault_.raise("makes more than " + std::to_string(most_objects) + " objects");
  number = static_cast<std::uint32_t>(objects_.size());
  objects_.emplace_back();
  return true;
}

void Memory::retire(std::uint32_t number) {
  Object& object = objects_[number];
  object.live = false;
  object.open_read = object.open_write = 0;
  object.own.reset();
  if (++object.generation <= most_generations) free_.push_back(number);
}

bool Memory::push(std::uint64_t size, Address& at) {
  std::uint32_t number = 0;
  if (!reserve(size)) return false;
  if (cost(size) > bytes_ - top_) return fault_.raise("needs more than " + std::to_string(bytes_) + " bytes");
  if (!fresh(number)) return false;
  Object& object = objects_[number];
  object.bytes = arena_.get() + top_;
  object.undefined = arena_.get() + bytes_ + top_;
  object.size = size;
  object.open_read = object.open_write = static_cast<std::uint32_t>(size);
  object.origin = Origin::stack;
  object.live = true;
  std::memset(object.bytes, 0, size);
  std::memset(object.undefined, 0xff, size);
  top_ += cost(size);
  live_ += cost(size);
  stack_.push_back(number);
  at = address(number, object.generation);
  return true;
}

void Memory::pop(std::size_t mark) {
  while (stack_.size() > mark) {
    const std::uint32_t number = stack_.back();
    stack_.pop_back();
    top_ -= cost(objects_[number].size);
    live_ -= cost(objects_[number].size);
    retire(number);
  }
}

void Memory::give_bytes(Object& object, std::uint64_t size) {
  object.own = std::make_unique<std::uint8_t[]>(2 * size + 2);
  object.bytes = object.own.get();
  object.undefined = object.bytes + size;
  object.size = size;
  object.live = true;
  std::memset(object.undefined, 0xff, size);
}

bool Memory::allocate(std::uint64_t size, Address& at, Origin origin) {
  std::uint32_t number = 0;
  if (!reserve(size) || !fresh(number)) return false;
  Object& object = objects_[number];
  give_bytes(object, size);
  object.origin = origin;
  live_ += cost(size);
  if (origin == Origin::given) {
    object.extra = static_cast<std::uint32_t>(traces_.size());
    traces_.push_back({std::vector<std::uint8_t>(size), false});
  } else {
    object.open_read = object.open_write = static_cast<std::uint32_t>(size);
  }
  at = address(number, object.generation);
  return true;
}

bool Memory::release(Address at) {
  if (at == 0) return true;
  Object* object = lookup(at);
  if (object == nullptr && number_of(at) < objects_.size() && generation_of(at) < objects_[number_of(at)].generation)
    return fault_.raise("releases memory twice");
  if (object == nullptr || !object->live || object->origin != Origin::heap || offset_of(at) != 0)
    return fault_.raise("releases what was not allocated");
  live_ -= cost(object->size);
  retire(number_of(at));
  return true;
}

bool Memory::size_of(Address at, std::uint64_t& size) {
  Object* object = nullptr;
  if (!within(at, 0, "reads", object)) return false;
  size = object->size;
  return true;
}

Address Memory::place_global(std::uint64_t size, GlobalTraits traits) {
  std::uint32_t number = 0;
  if (!fresh(number)) return 0;
  Object& object = objects_[number];
  object.origin = Origin::global;
  object.live = true;
  object.size = size > largest ? 0 : size;
  object.extra = static_cast<std::uint32_t>(globals_.size());
  const Address at = address(number, object.generation);
  globals_.push_back({std::move(traits), at, {}, false, false, false});
  globals_.back().settled = globals_.back().traits.guard;
  return at;
}

Address Memory::place_function(std::uint32_t function) {
  std::uint32_t number = 0;
  if (!fresh(number)) return 0;
  objects_[number].origin = Origin::function;
  objects_[number].extra = function;
  objects_[number].size = 0;
  objects_[number].live = true;
  return address(number, objects_[number].generation);
}

std::optional<std::uint32_t> Memory::function_at(Address at) const {
  const Object* object = lookup(at);
  if (object == nullptr || !object->live || object->origin != Origin::function || offset_of(at) != 0)
    return std::nullopt;
  return object->extra;
}

bool Memory::within(Address at, std::uint64_t size, const char* verb, Object*& object) {
  const std::string what = verb;
  if (at < null_page) return fault_.raise(what + " through a null pointer");
  object = lookup(at);
  const std::uint32_t number = number_of(at);
  if (object == nullptr || !object->live) {
    const bool released = number < objects_.size() && number > 0 && generation_of(at) > 0 &&
                          generation_of(at) < objects_[number].generation;
    return fault_.raise(what + (released ? " memory after its release" : " through a wild pointer"));
  }
  if (object->origin == Origin::function) return fault_.raise(what + " through a pointer to a function");
  const std::uint64_t offset = offset_of(at);
  if (offset > object->size || size > object->size - offset) return fault_.raise(what + " outside an object");
  return true;
}

bool Memory::readable_closely(Address at, std::uint64_t size, Place& place) {
  Object* object = nullptr;
  if (size == 0) return true;
  if (!within(at, size, "reads", object) || !lay_out(at, object)) return false;
  const std::uint64_t offset = offset_of(at);
  if (object->origin == Origin::global && !read_global(*object, offset, size)) return false;
  if (Trace* trace = trace_of(*object)) {
    trace->touched = true;
    for (std::uint64_t i = offset; i < offset + size; ++i)
      if ((trace->marks[i] & mark_written) == 0) trace->marks[i] |= mark_read;
  }
  place = {object->bytes + offset, object->undefined + offset};
  return true;
}

bool Memory::writable_closely(Address at, std::uint64_t size, Place& place) {
  Object* object = nullptr;
  if (size == 0) return true;
  if (!within(at, size, "writes", object) || !lay_out(at, object)) return false;
  const std::uint64_t offset = offset_of(at);
  if (object->origin == Origin::global && !write_global(*object)) return false;
  if (Trace* trace = trace_of(*object)) {
    trace->touched = true;
    for (std::uint64_t i = offset; i < offset + size; ++i) trace->marks[i] |= mark_written;
  }
  place = {object->bytes + offset, object->undefined + offset};
  return true;
}

bool Memory::read_global(Object& object, std::uint64_t offset, std::uint64_t size) {
  Global& global = globals_[object.extra];
  if (global.traits.constant && global.traits.fill) {
    object.open_read = static_cast<std::uint32_t>(object.size);
    return true;
  }
  if (global.settled) return true;
  global.read = true;
  for (std::uint64_t i = offset; i < offset + size; ++i)
    if (object.undefined[i] != 0 && !global.traits.fill)
      return fault_.raise("reads the global " + global.traits.name + ", whose value is not known");
  return true;
}

bool Memory::write_global(Object& object) {
  Global& global = globals_[object.extra];
  if (global.traits.guard) return true;
  if (global.traits.constant) return fault_.raise("writes to the constant " + global.traits.name);
  if (!global.traits.local || guards_ == 0) return fault_.raise("writes to the global " + global.traits.name);
  global.settled = true;
  return true;
}

// The first values of others may be placed meanwhile: the object is looked up again.
bool Memory::lay_out(Address at, Object*& object) {
  if (object->origin != Origin::global) return true;
  Global& global = globals_[object->extra];
  if (global.laid_out) return true;
  if (object->size > bytes_ || laid_ + object->size > 4 * bytes_)
    return fault_.raise("needs more than " + std::to_string(bytes_) + " bytes");
  laid_ += object->size;
  global.laid_out = true;
  give_bytes(*object, object->size);
  if (!global.traits.constant) global.trace.marks.resize(object->size);
  if (!global.traits.fill) return true;
  std::memset(object->undefined, 0, object->size);
  global.traits.fill({object->bytes, object->undefined});
  object = lookup(at);
  if (fault_.why().empty()) return true;
  global.laid_out = false;
  laid_ -= object->size;
  return false;
}

}  // namespace dextral::probe::machine
