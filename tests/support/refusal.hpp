// The message and place of an InputError or JobError that a call must throw.
#pragma once

#include <catch2/catch.hpp>
#include <string>

#include "clickwise/core/errors.hpp"

namespace clickwise::test {

// what() of the error; fails the test when nothing, or something else, is thrown.
template <class Error = core::InputError, class Call>
std::string refusal(Call&& call) {
  try {
    call();
  } catch (const Error& error) {
    return error.what();
  }
  FAIL("no error was thrown");
  return {};
}

}  // namespace clickwise::test
