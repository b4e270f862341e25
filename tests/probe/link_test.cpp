// Functions that other units define.
#include "probe/link.h"

#include <llvm/IR/Function.h>
#include <llvm/IR/Module.h>

#include "tests/probe/source.h"

namespace dextral::probe {
namespace {

bool has_body(const Kit& kit, const char* symbol) {
  const llvm::Function* function = kit.module->getFunction(symbol);
  return function && !function->isDeclaration();
}

Facts facts_of(const std::string& unit, const std::string& defines, const std::string& calls = "") {
  Facts facts;
  facts.unit = unit;
  facts.functions.emplace_back();
  facts.functions[0].key = defines;
  facts.functions[0].body = true;
  if (!calls.empty()) facts.functions[0].calls.push_back({calls, "", false, {}});
  return facts;
}

class Link : public testing::Test {
 protected:
  Link() : source_("use.c", "double twice(double); double f(double x) { return twice(x); }") {
    const std::string kit = source_.add("kit.c", "double half(double); double twice(double x) { return x / half(1); } void other(void) {}").file;
    const std::string more = source_.add("more.c", "static double two(void) { return 2; } double half(double x) { return x / two(); }").file;
    elsewhere_ = elsewhere({facts_of(source_.project.units[0].file, "c:@F@f", "c:@F@twice"),
                            facts_of(kit, "c:@F@twice", "c:@F@half"), facts_of(more, "c:@F@half")});
  }

  Kit linked() {
    Kit kit = emit(source_.unit(), source_.project, {}, source_.files);
    link(kit, source_.project, elsewhere_);
    return kit;
  }

  SourceFile source_;
  Elsewhere elsewhere_;
};

TEST_F(Link, WhatIsCalledAndWhatThatCalls) {
  const Kit kit = linked();
  EXPECT_TRUE(has_body(kit, "twice"));
  EXPECT_TRUE(has_body(kit, "half"));
  EXPECT_FALSE(has_body(kit, "other"));
  EXPECT_TRUE(kit.missing.empty());
}

TEST_F(Link, BitcodeIsKeptForOtherWorkers) {
  elsewhere_.folder = source_.folder();
  linked();
  source_.write("kit.c", "this is read no more");
  EXPECT_TRUE(has_body(linked(), "twice"));
}

TEST_F(Link, WhatNobodyDefinesIsListed) {
  elsewhere_ = {};
  const Kit kit = linked();
  EXPECT_FALSE(has_body(kit, "twice"));
  EXPECT_EQ(kit.missing, (std::set<std::string>{"twice"}));
}

}  // namespace
}  // namespace dextral::probe
