// Programs for the machine: IR as text, or C and C++ compiled by clang.
#pragma once

#include <gtest/gtest.h>
#include <llvm/AsmParser/Parser.h>
#include <llvm/IR/LLVMContext.h>
#include <llvm/IR/Module.h>
#include <llvm/IRReader/IRReader.h>
#include <llvm/Support/SourceMgr.h>
#include <stdlib.h>
#include <unistd.h>

#include <cstring>
#include <filesystem>
#include <fstream>
#include <initializer_list>

#include "probe/machine.h"

namespace dextral::probe::test {

class Program {
 public:
  static Program ir(const std::string& text) {
    Program made;
    llvm::SMDiagnostic error;
    const char* target =
        "target datalayout = \"e-m:e-p270:32:32-p271:32:32-p272:64:64-i64:64-i128:128-f80:128-n8:16:32:64-S128\"\n"
        "target triple = \"x86_64-pc-linux-gnu\"\n";
    made.module_ = llvm::parseAssemblyString(target + text, error, *made.context_);
    EXPECT_NE(made.module_, nullptr) << error.getMessage().str() << " in line " << error.getLineNo();
    return made;
  }

  static Program compiled(const std::string& source, const std::string& language, const std::string& options) {
    Program made;
    char folder[] = "/tmp/machine-test-XXXXXX";
    if (mkdtemp(folder) == nullptr) return made;
    const std::string path = std::string(folder) + "/unit." + language;
    std::ofstream(path) << source;
    const std::string command = "clang++-19 -x " + std::string(language == "c" ? "c" : "c++ -std=c++20") + " " +
                                options + " -I/usr/include/eigen3 -emit-llvm -c -o " + path + ".bc " + path;
    EXPECT_EQ(std::system(command.c_str()), 0);
    llvm::SMDiagnostic error;
    made.module_ = llvm::parseIRFile(path + ".bc", error, *made.context_);
    EXPECT_NE(made.module_, nullptr);
    std::filesystem::remove_all(folder);
    return made;
  }

  const llvm::Module& module() const { return *module_; }

  Machine& machine(Bounds bounds = {}) {
    if (!machine_) machine_ = std::make_unique<Machine>(*module_, bounds);
    return *machine_;
  }

  std::variant<Word, Refusal> run(const char* name, const std::vector<Word>& arguments = {}) {
    const llvm::Function* function = module_->getFunction(name);
    if (function == nullptr) return Refusal{std::string("there is no ") + name};
    return machine().call(*function, arguments);
  }

  template <typename T>
  T value(const char* name, const std::vector<Word>& arguments = {}) {
    auto got = run(name, arguments);
    if (auto* refusal = std::get_if<Refusal>(&got)) {
      ADD_FAILURE() << name << ": " << refusal->why;
      return T{};
    }
    const Word& word = std::get<Word>(got);
    EXPECT_TRUE(std::holds_alternative<T>(word));
    return std::holds_alternative<T>(word) ? std::get<T>(word) : T{};
  }
  double number(const char* name, const std::vector<Word>& arguments = {}) { return value<double>(name, arguments); }
  std::uint64_t bits(const char* name, const std::vector<Word>& arguments = {}) {
    return value<std::uint64_t>(name, arguments);
  }

  std::string refusal(const char* name, const std::vector<Word>& arguments = {}) {
    auto got = run(name, arguments);
    return std::holds_alternative<Refusal>(got) ? std::get<Refusal>(got).why : "no refusal";
  }

  template <typename T>
  Address object(std::initializer_list<T> values) {
    return object(std::vector<T>(values));
  }
  template <typename T>
  Address object(const std::vector<T>& values) {
    auto at = machine().allocate(values.size() * sizeof(T));
    EXPECT_TRUE(std::holds_alternative<Address>(at));
    const Address address = std::get<Address>(at);
    machine().write(address, std::as_bytes(std::span<const T>(values)));
    return address;
  }
  template <typename T>
  Address room(std::size_t count) {
    return std::get<Address>(machine().allocate(count * sizeof(T)));
  }
  template <typename T>
  std::vector<T> read(Address at, std::size_t count) {
    auto got = machine().read(at, count * sizeof(T));
    std::vector<T> values(count);
    if (auto* refusal = std::get_if<Refusal>(&got))
      ADD_FAILURE() << refusal->why;
    else
      std::memcpy(values.data(), std::get<0>(got).data(), count * sizeof(T));
    return values;
  }

 private:
  std::unique_ptr<llvm::LLVMContext> context_ = std::make_unique<llvm::LLVMContext>();
  std::unique_ptr<llvm::Module> module_;
  std::unique_ptr<Machine> machine_;
};

}  // namespace dextral::probe::test
