// Aggregates from a state class, for GROUP BY, FILTER and OVER alike.
//
//   struct State {
//     void Step(const Call& call);           // one row enters
//     void Inverse(const Call& call);        // the oldest row leaves (window frames)
//     void Answer(const Call& call);         // the result of the rows now in; may be asked
//     repeatedly
//   };
//   constexpr AggregateMethods kMethods = AggregateOf<State>();
//
// A group or frame without rows answers from a fresh State. `call` in Answer has no arguments.
// The state is one owned pointer in the host's zeroed bytes; Final takes ownership before it
// computes, so that errors free it too. A state without Inverse makes a plain aggregate (no OVER).
#ifndef LADDERLINE_EXT_AGGREGATE_H_
#define LADDERLINE_EXT_AGGREGATE_H_

#include <memory>
#include <utility>

#include "ext/call.h"

namespace ladderline {

struct AggregateMethods {
  void (*step)(sqlite3_context*, int, sqlite3_value**);
  void (*final)(sqlite3_context*);
  void (*value)(sqlite3_context*);                          // null: no OVER
  void (*inverse)(sqlite3_context*, int, sqlite3_value**);  // null: no OVER
};

template <class State>
struct AggregateAdaptor {
  static State& Get(sqlite3_context* context) {
    auto** slot = static_cast<State**>(sqlite3_aggregate_context(context, sizeof(State*)));
    if (slot == nullptr) throw std::bad_alloc();
    if (*slot == nullptr) *slot = new State();
    return **slot;
  }
  // A row that fails may leave the state half changed, and the host still asks for an answer while
  // it unwinds: the state goes.
  template <class Body>
  static void Move(sqlite3_context* context, Body&& body) {
    try {
      body(Get(context));
    } catch (...) {
      const std::unique_ptr<State> spoilt(Release(context));
      throw;
    }
  }
  static State* Release(sqlite3_context* context) {
    auto** slot = static_cast<State**>(sqlite3_aggregate_context(context, 0));
    return slot == nullptr ? nullptr : std::exchange(*slot, nullptr);
  }
  static State* Peek(sqlite3_context* context) {
    auto** slot = static_cast<State**>(sqlite3_aggregate_context(context, 0));
    return slot == nullptr ? nullptr : *slot;
  }
  static void AnswerFrom(sqlite3_context* context, State* state) {
    const Call call(context, 0, nullptr);
    if (state != nullptr) {
      state->Answer(call);
    } else {
      State().Answer(call);
    }
  }
  static void Step(sqlite3_context* context, int count, sqlite3_value** values) {
    Guard(context, [&] {
      const Call call(context, count, values);
      call.CheckCount();
      Move(context, [&](State& s) { s.Step(call); });
    });
  }
  static void Inverse(sqlite3_context* context, int count, sqlite3_value** values) {
    Guard(context,
          [&] { Move(context, [&](State& s) { s.Inverse(Call(context, count, values)); }); });
  }
  static void Value(sqlite3_context* context) {
    Guard(context, [&] { AnswerFrom(context, Peek(context)); });
  }
  static void Final(sqlite3_context* context) {
    const std::unique_ptr<State> state(Release(context));
    Guard(context, [&] { AnswerFrom(context, state.get()); });
  }
};

template <class State>
constexpr AggregateMethods AggregateOf() {
  using Adaptor = AggregateAdaptor<State>;
  if constexpr (requires(State & state, const Call& call) { state.Inverse(call); }) {
    return {Adaptor::Step, Adaptor::Final, Adaptor::Value, Adaptor::Inverse};
  } else {
    return {Adaptor::Step, Adaptor::Final, nullptr, nullptr};
  }
}

}  // namespace ladderline

#endif  // LADDERLINE_EXT_AGGREGATE_H_
