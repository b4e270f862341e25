// Any verified IR runs to an end: valid modules are damaged instruction by
// instruction, verified, and every function is run with numbers of the input.
#include "probe/machine.h"

#include <llvm/AsmParser/Parser.h>
#include <llvm/IR/Constants.h>
#include <llvm/IR/InstIterator.h>
#include <llvm/IR/Instructions.h>
#include <llvm/IR/LLVMContext.h>
#include <llvm/IR/Module.h>
#include <llvm/IR/Verifier.h>
#include <llvm/Support/SourceMgr.h>

namespace {

const char* const sources[] = {
    R"(
target datalayout = "e-m:e-p270:32:32-p271:32:32-p272:64:64-i64:64-i128:128-f80:128-n8:16:32:64-S128"
%vec = type { double, double, double }
@g = global [4 x double] [double 1.0, double 2.0, double 3.0, double 4.0]
@c = constant [3 x ptr] [ptr @leaf, ptr @g, ptr null]
@x = external global i32
declare double @sin(double)
declare ptr @malloc(i64)
declare ptr @realloc(ptr, i64)
declare void @free(ptr)
declare void @sincos(double, ptr, ptr)
declare i64 @strlen(ptr)
declare double @frexp(double, ptr)
declare double @llvm.fma.f64(double, double, double)
declare i32 @llvm.ctlz.i32(i32, i1)
declare i32 @llvm.fshl.i32(i32, i32, i32)
declare i32 @llvm.sadd.sat.i32(i32, i32)
declare {i32, i1} @llvm.smul.with.overflow.i32(i32, i32)
declare void @llvm.memcpy.p0.p0.i64(ptr, ptr, i64, i1)
declare void @llvm.memset.p0.i64(ptr, i8, i64, i1)
declare void @llvm.lifetime.end.p0(i64, ptr)
declare ptr @llvm.stacksave.p0()
declare void @llvm.stackrestore.p0(ptr)
define double @leaf(double %a, i32 %n) {
  %i = sitofp i32 %n to double
  %s = call double @sin(double %i)
  %m = call double @llvm.fma.f64(double %a, double %s, double %i)
  ret double %m
}
define i32 @ints(i32 %a, i64 %b, i8 %c) {
  %t = trunc i64 %b to i32
  %s = add nsw i32 %a, %t
  %d = sdiv i32 %s, %t
  %h = shl nuw i32 %d, %a
  %z = sext i8 %c to i32
  %l = call i32 @llvm.ctlz.i32(i32 %h, i1 true)
  %f = call i32 @llvm.fshl.i32(i32 %l, i32 %z, i32 %a)
  %q = call i32 @llvm.sadd.sat.i32(i32 %f, i32 %s)
  %o = call {i32, i1} @llvm.smul.with.overflow.i32(i32 %q, i32 %a)
  %v = extractvalue {i32, i1} %o, 0
  %w = extractvalue {i32, i1} %o, 1
  %r = select i1 %w, i32 %v, i32 %z
  %k = ashr exact i32 %r, %z
  %u = urem i32 %k, %a
  %x = or disjoint i32 %u, %z
  ret i32 %x
}
define double @memory(ptr %p, i64 %n, double %a) {
entry:
  %save = call ptr @llvm.stacksave.p0()
  %buffer = alloca [8 x double], align 16
  %many = alloca double, i64 %n
  %heap = call ptr @malloc(i64 64)
  call void @llvm.memset.p0.i64(ptr %buffer, i8 0, i64 64, i1 false)
  call void @llvm.memcpy.p0.p0.i64(ptr %heap, ptr %buffer, i64 64, i1 false)
  call void @sincos(double %a, ptr %buffer, ptr %many)
  br label %loop
loop:
  %i = phi i64 [ 0, %entry ], [ %next, %loop ]
  %sum = phi double [ %a, %entry ], [ %more, %loop ]
  %at = getelementptr inbounds [8 x double], ptr %buffer, i64 0, i64 %i
  %value = load double, ptr %at
  %other = getelementptr double, ptr @g, i64 %i
  %second = load double, ptr %other
  %mul = fmul double %value, %second
  %more = fadd double %sum, %mul
  store double %more, ptr %at
  %next = add nuw i64 %i, 1
  %go = icmp ult i64 %next, 4
  br i1 %go, label %loop, label %done
done:
  %big = call ptr @realloc(ptr %heap, i64 %n)
  %e = call double @frexp(double %more, ptr %big)
  %length = call i64 @strlen(ptr %big)
  call void @free(ptr %big)
  call void @llvm.lifetime.end.p0(i64 64, ptr %buffer)
  call void @llvm.stackrestore.p0(ptr %save)
  %k = call double @indirect(i64 %length, double %e)
  ret double %k
}
define double @indirect(i64 %i, double %a) {
  %at = getelementptr [3 x ptr], ptr @c, i64 0, i64 %i
  %f = load ptr, ptr %at
  %r = call double %f(double %a, i32 3)
  ret double %r
}
)",
    R"(
target datalayout = "e-m:e-p270:32:32-p271:32:32-p272:64:64-i64:64-i128:128-f80:128-n8:16:32:64-S128"
%pair = type { float, { i8, double }, <2 x float> }
@k = constant %pair { float 1.0, { i8, double } { i8 3, double undef }, <2 x float> <float 1.0, float 2.0> }
declare float @llvm.vector.reduce.fadd.v4f32(float, <4 x float>)
declare <4 x float> @llvm.maximum.v4f32(<4 x float>, <4 x float>)
declare i1 @llvm.is.fpclass.f32(float, i32)
declare void @__cxa_throw(ptr, ptr, ptr)
define <4 x float> @vectors(<4 x float> %a, <2 x double> %b, i32 %n) {
  %i = extractelement <4 x float> %a, i32 %n
  %c = insertelement <4 x float> %a, float %i, i32 %n
  %s = shufflevector <4 x float> %a, <4 x float> %c, <4 x i32> <i32 7, i32 0, i32 undef, i32 3>
  %m = call <4 x float> @llvm.maximum.v4f32(<4 x float> %s, <4 x float> %a)
  %f = fptrunc <2 x double> %b to <2 x float>
  %l = bitcast <2 x float> %f to i64
  %v = bitcast i64 %l to <4 x i16>
  %g = icmp slt <4 x i16> %v, <i16 1, i16 2, i16 3, i16 4>
  %x = select <4 x i1> %g, <4 x float> %m, <4 x float> %c
  %w = bitcast <4 x i1> %g to i4
  %z = zext i4 %w to i32
  %h = sitofp i32 %z to float
  %r = call float @llvm.vector.reduce.fadd.v4f32(float %h, <4 x float> %x)
  %t = call i1 @llvm.is.fpclass.f32(float %r, i32 3)
  %y = select i1 %t, <4 x float> %x, <4 x float> %s
  ret <4 x float> %y
}
define %pair @parts(ptr byval(%pair) %p, i32 %n) {
entry:
  %a = load %pair, ptr %p
  %b = extractvalue %pair %a, 1
  %c = insertvalue { i8, double } %b, double 3.0, 1
  %d = insertvalue %pair %a, { i8, double } %c, 1
  store %pair %d, ptr %p
  switch i32 %n, label %last [ i32 0, label %one
                               i32 1, label %two
                               i32 2, label %one ]
one:
  %e = load %pair, ptr @k
  br label %last
two:
  %r = call %pair @parts(ptr byval(%pair) %p, i32 %n)
  br label %last
last:
  %o = phi %pair [ %d, %entry ], [ %e, %one ], [ %r, %two ]
  ret %pair %o
}
define i33 @odd(i33 %a, i1 %b, float %f) personality ptr null {
  %c = zext i1 %b to i33
  %d = fptosi float %f to i33
  %e = mul nsw i33 %a, %d
  %g = freeze i33 %e
  %h = xor i33 %g, %c
  %i = inttoptr i33 %h to ptr
  %j = ptrtoint ptr %i to i33
  %k = fcmp ueq float %f, 1.0
  br i1 %k, label %x, label %y
x:
  ret i33 %j
y:
  invoke void @__cxa_throw(ptr null, ptr null, ptr null) to label %x unwind label %z
z:
  %l = landingpad { ptr, i32 } cleanup
  resume { ptr, i32 } %l
}
)"};

class Input {
 public:
  Input(const unsigned char* data, std::size_t size) : data_(data), size_(size) {}
  bool empty() const { return at_ >= size_; }
  unsigned byte() { return empty() ? 0 : data_[at_++]; }
  unsigned below(std::size_t bound) { return bound == 0 ? 0 : (byte() << 8 | byte()) % static_cast<unsigned>(bound); }
  std::uint64_t word() {
    std::uint64_t made = 0;
    for (int i = 0; i < 8; ++i) made = made << 8 | byte();
    return made;
  }

 private:
  const unsigned char* data_;
  std::size_t size_, at_ = 0;
};

llvm::Constant* constant(llvm::Type* type, Input& input) {
  static const std::uint64_t edges[] = {0, 1, 2, 7, 31, 32, 63, 64, 255, ~0ull, 1ull << 31, 1ull << 63, 1ull << 32};
  const unsigned kind = input.byte();
  if (kind % 16 == 0) return llvm::PoisonValue::get(type);
  if (kind % 16 == 1) return llvm::UndefValue::get(type);
  const std::uint64_t bits = kind % 2 != 0 ? edges[input.below(std::size(edges))] : input.word();
  if (type->isIntegerTy() && type->getIntegerBitWidth() <= 64)
    return llvm::ConstantInt::get(type, bits & (~0ull >> (64 - type->getIntegerBitWidth())));
  if (type->isDoubleTy()) return llvm::ConstantFP::get(type, std::bit_cast<double>(bits));
  if (type->isFloatTy()) return llvm::ConstantFP::get(type, std::bit_cast<float>(static_cast<std::uint32_t>(bits)));
  if (type->isPointerTy() && kind % 4 == 2)
    return llvm::ConstantExpr::getIntToPtr(llvm::ConstantInt::get(llvm::Type::getInt64Ty(type->getContext()), bits),
                                           type);
  return llvm::Constant::getNullValue(type);
}

void damage(llvm::Function& function, Input& input) {
  std::vector<llvm::Instruction*> all;
  for (llvm::Instruction& one : llvm::instructions(function)) all.push_back(&one);
  if (all.empty()) return;
  llvm::Instruction& target = *all[input.below(all.size())];
  const unsigned what = input.byte() % 4;
  if (target.getNumOperands() == 0) return;
  const unsigned slot = input.below(target.getNumOperands());
  llvm::Type* type = target.getOperand(slot)->getType();
  if (type->isLabelTy() || type->isMetadataTy() || type->isTokenTy()) {
    if (!type->isLabelTy()) return;
    auto block = std::next(function.begin(), input.below(function.size()));
    target.setOperand(slot, &*block);
    return;
  }
  if (auto* binary = llvm::dyn_cast<llvm::BinaryOperator>(&target); binary != nullptr && what == 0) {
    const bool whole = type->isIntOrIntVectorTy();
    static const llvm::Instruction::BinaryOps integers[] = {
        llvm::Instruction::Add,  llvm::Instruction::Sub,  llvm::Instruction::Mul,  llvm::Instruction::UDiv,
        llvm::Instruction::SDiv, llvm::Instruction::URem, llvm::Instruction::SRem, llvm::Instruction::Shl,
        llvm::Instruction::LShr, llvm::Instruction::AShr, llvm::Instruction::And,  llvm::Instruction::Or,
        llvm::Instruction::Xor};
    static const llvm::Instruction::BinaryOps numbers[] = {llvm::Instruction::FAdd, llvm::Instruction::FSub,
                                                           llvm::Instruction::FMul, llvm::Instruction::FDiv,
                                                           llvm::Instruction::FRem};
    auto* other = llvm::BinaryOperator::Create(whole ? integers[input.below(13)] : numbers[input.below(5)],
                                               binary->getOperand(0), binary->getOperand(1), "", binary->getIterator());
    binary->replaceAllUsesWith(other);
    binary->eraseFromParent();
    return;
  }
  if (what == 1) {
    target.setOperand(slot, constant(type, input));
    return;
  }
  std::vector<llvm::Value*> same;
  for (llvm::Argument& argument : function.args())
    if (argument.getType() == type) same.push_back(&argument);
  for (llvm::Instruction* one : all)
    if (one->getType() == type) same.push_back(one);
  if (type->isPointerTy()) {
    for (llvm::GlobalVariable& global : function.getParent()->globals()) same.push_back(&global);
    for (llvm::Function& one : *function.getParent())
      if (!one.isIntrinsic()) same.push_back(&one);
  }
  if (!same.empty()) target.setOperand(slot, same[input.below(same.size())]);
}

dextral::probe::Word argument(llvm::Type* type, const llvm::DataLayout& layout, dextral::probe::Machine& machine,
                              Input& input) {
  if (type->isDoubleTy()) return std::bit_cast<double>(input.word());
  if (type->isFloatTy()) return std::bit_cast<float>(static_cast<std::uint32_t>(input.word()));
  if (type->isIntegerTy()) return input.byte() % 2 != 0 ? input.word() : std::uint64_t{input.byte()} % 8;
  if (!type->isPointerTy()) return std::vector<std::byte>(layout.getTypeAllocSize(type), std::byte{1});
  auto place = machine.allocate(64);
  auto* at = std::get_if<dextral::probe::Address>(&place);
  if (at == nullptr) return std::uint64_t{0};
  machine.write(*at, std::vector<std::byte>(48, std::byte{2}));
  return *at;
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const unsigned char* data, std::size_t size) {
  using namespace dextral::probe;
  Input input(data, size);
  llvm::LLVMContext context;
  llvm::SMDiagnostic error;
  auto module = llvm::parseAssemblyString(sources[input.byte() % 2], error, context);
  if (!module) std::abort();
  std::vector<llvm::Function*> bodies;
  for (llvm::Function& function : *module)
    if (!function.isDeclaration()) bodies.push_back(&function);
  for (unsigned i = input.byte() % 16; i > 0; --i) damage(*bodies[input.below(bodies.size())], input);
  if (llvm::verifyModule(*module)) return 0;
  Machine machine(*module, {20000, 1 << 16, 50});
  for (int round = 0; round < 2; ++round) {
    for (const llvm::Function* function : bodies) {
      std::vector<Word> arguments;
      for (const llvm::Argument& one : function->args())
        arguments.push_back(argument(one.getType(), module->getDataLayout(), machine, input));
      machine.call(*function, arguments);
      for (const Word& word : arguments)
        if (auto* at = std::get_if<std::uint64_t>(&word)) machine.read(*at, 8), machine.traffic(*at);
      machine.globals_read();
    }
  }
  return 0;
}
