// The function being written: values and operations in the order of the text.
#pragma once

#include <map>
#include <string>
#include <utility>

#include "core/facts.h"

namespace dextral::gather {

class Recorder {
 public:
  Function function;
  std::vector<std::uint32_t> arms;  // of the branches around

  ValueId value(Shape shape, bool rotation, std::string text, Span span, std::string inverse_form = {}) {
    function.values.push_back({shape, rotation, std::move(text), std::move(inverse_form), span});
    return ValueId(function.values.size() - 1);
  }
  Value& at(ValueId id) { return function.values.at(std::size_t(id)); }

  Operation& operation(OperationKind kind, ValueId result, std::vector<Operand> operands, Span span, std::string text) {
    Operation op;
    op.kind = kind;
    op.result = result;
    op.operands = std::move(operands);
    op.span = span;
    op.text = std::move(text);
    op.arms = arms;
    function.operations.push_back(std::move(op));
    carry_rotation(function.operations.back());
    return function.operations.back();
  }

  void hold(ValueId value, Hold hold, Span span, std::string text) {
    Operation& op = operation(OperationKind::hold, ValueId::none, {{value, {}, std::move(text)}}, span, {});
    op.text = op.operands[0].text;
    op.item = std::uint32_t(function.holds.size());
    function.holds.push_back(std::move(hold));
  }

  // The value of a path at an epoch, made once.
  std::pair<ValueId, bool> reading(const std::string& path, std::uint32_t epoch, const Value& like) {
    auto [found, fresh] = readings_.try_emplace({path, epoch}, ValueId::none);
    if (fresh) {
      function.values.push_back(like);
      found->second = ValueId(function.values.size() - 1);
      function.readings.push_back({path, epoch, found->second});
    }
    return {found->second, fresh};
  }

 private:
  // What is made of a vector of a rotation's numbers is one too.
  void carry_rotation(const Operation& op) {
    if (op.result == ValueId::none || !keeps_kind(op.kind)) return;
    for (const Operand& operand : op.operands)
      if (operand.value != ValueId::none && at(operand.value).of_rotation) at(op.result).of_rotation = true;
  }

  std::map<std::pair<std::string, std::uint32_t>, ValueId> readings_;
};

}  // namespace dextral::gather
