// Library models: what the types and functions of a maths library mean.
//
// A model is data: rules/libraries/*.json, or a project's own files in the same
// format (docs/library-models.md). It says the shape of each type and, per
// function, one operation of the algebra and which argument plays which part.
// Argument 0 is the object, 1, 2 ... the arguments.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "core/facts.h"

namespace dextral::project {

struct TypeModel {
  std::string name;  // qualified, without template arguments: "KDL::Rotation"
  Shape shape = Shape::unknown;
  // Where the shape depends on a template: names of static constants of the
  // class that give the dimensions ("RowsAtCompileTime"). 3x3 is a matrix,
  // Nx1 a vector, 1xN a row, 1x1 a number.
  std::string rows, columns;
  // Or template arguments (from 0) that are the dimensions: "rows argument",
  // "columns argument" in the file; rows alone make a vector, columns alone a
  // row; -1: none.
  int rows_argument = -1, columns_argument = -1;
  std::string inverse_form;  // "{}.transpose()"
  // Template argument (from 0) that holds the element type of a container or
  // the mapped type of a view; -1: none.
  int element = -1;
};

inline constexpr int kReturn = -1;

struct FunctionModel {
  std::string name;  // qualified, without template arguments
  // Shapes of the arguments (object not counted) for which this entry holds;
  // empty: any. "number", "vector", "matrix", "rotation", "quaternion", "pose", "any".
  std::vector<std::string> given;
  std::string object;  // shape of the object for which it holds; empty: any
  // One of the operation names of core/algebra.h, or: literal, opaque, element,
  // elements, stream, part, fill.
  std::string is;
  std::vector<int> of;          // operands, in the order of the algebra
  std::vector<int> transposed;  // operands taken transposed or inverted
  int into = kReturn;           // kReturn, or the argument that is written
  bool also_returned = false;   // written in place and returned too
  std::string order;            // of elements: "rows", "columns", "xyzw", "wxyz"
  int base = 0;                 // first index of an element accessor
  int factor = 0;               // of copy: 1 or -1 exactly; 0: scaled or normalised
  int index = -1;               // of element, column, row: fixed index; -1: the argument
  // Of builders and extractors (kept for the conventions): as in the file.
  std::string sequence, sense, turning, unit;
  std::vector<int> angles;
};

struct LibraryModel {
  std::string library;
  std::vector<TypeModel> types;
  std::vector<FunctionModel> functions;
};

struct Problem {  // place and remedy of something wrong in a file
  std::string file;
  std::uint32_t line = 0, column = 0;
  std::string message;
  std::string remedy;
};

// Parses one model file. Problems are appended; what is right is kept.
LibraryModel read_model(const std::string& file, const std::string& text, std::vector<Problem>& problems);

// All models of a run, looked up by name. What is added later counts first, so
// that a project's own model can correct one that came with the program.
class ModelTable {
 public:
  void add(const LibraryModel&);
  const TypeModel* type(const std::string& qualified_name) const;
  const std::vector<FunctionModel>* functions(const std::string& qualified_name) const;
  // Functions (by their last name) that do the same as this one, with one
  // argument taken inverted or no longer inverted: that argument, and the name;
  // the most alike first.
  std::vector<std::pair<int, std::string>> twins(const FunctionModel&) const;

 private:
  std::map<std::string, TypeModel> types_;
  std::map<std::string, std::vector<FunctionModel>> functions_;
};

}  // namespace dextral::project
