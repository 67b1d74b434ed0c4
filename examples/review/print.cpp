// review, as a text: a table of runs, one of counts, one of statements.
#include "print.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <string>
#include <vector>

namespace review {

namespace {

using namespace wend;

void print_runs(lab::Review const& review) {
  std::printf("%s: %zu discs, %.1f m as the crow flies, seed %llu\n\n", review.title.c_str(), review.world.discs.size(),
              (review.trip.goal - review.trip.start.position).norm(), static_cast<unsigned long long>(review.seed));
  std::printf("%-16s %-20s %7s %7s %10s %12s %12s\n", "policy", "ending", "time", "path", "clearance", "switches",
              "dwell");
  std::printf("%-16s %-20s %7s %7s %10s %12s %12s\n", "", "", "s", "ratio", "least, cm", "a minute", "least, s");
  for (lab::PolicyReview const& policy : review.policies) {
    lab::Run const& run = policy.run;
    std::string ending = text(run.ending);
    if (run.ending == lab::Ending::time_out) {
      ending = ending + ": " + text(run.last_status);
    }
    double const a_minute = 60.0 * run.switches / std::max(run.time, 1e-9);
    std::string const dwell = run.switches < 2 ? "-" : lab::detail::fixed(run.least_dwell, 2);
    std::printf("%-16s %-20s %7.1f %7.2f %10.0f %12.1f %12s\n", policy.name.c_str(), ending.c_str(), run.time,
                run.path_length / run.straight_length, 100.0 * run.least_clearance, a_minute, dwell.c_str());
  }
}

void print_counts(lab::Review const& review) {
  if (std::all_of(review.policies.begin(), review.policies.end(), [](auto const& p) { return p.rows.empty(); })) {
    return;
  }
  std::printf("\nDrawn starts, goals and errors:\n\n%-16s %20s %19s %9s %8s %12s\n", "policy", "arrived",
              "95 % sure: at least", "contacts", "time", "clearance");
  std::printf("%-16s %20s %19s %9s %8s %12s\n", "", "", "%", "", "median", "5 % under, cm");
  for (lab::PolicyReview const& policy : review.policies) {
    lab::Tally const& t = policy.tally;
    if (t.runs > 0) {
      double const low = 1.0 - lab::upper_bound_on_probability(t.runs - t.arrived, t.runs);
      std::string const median = t.arrived > 0 ? lab::detail::fixed(t.time.median) : "-";
      std::printf("%-16s %20s %19.2f %9llu %8s %13.1f\n", policy.name.c_str(),
                  lab::detail::of_runs(t.arrived, t.runs).c_str(), std::floor(1e4 * low) / 100.0,
                  static_cast<unsigned long long>(t.contacts), median.c_str(), 100.0 * t.clearance.low);
    }
  }
}

// By claim, so that policies can be compared.
void print_statements(lab::Review const& review) {
  std::vector<std::string> told;
  for (lab::PolicyReview const& first : review.policies) {
    for (lab::Statement const& claimed : first.statements) {
      if (std::find(told.begin(), told.end(), claimed.claim) != told.end()) {
        continue;
      }
      told.push_back(claimed.claim);
      std::printf("\n%s (%s):\n", claimed.claim.c_str(), text(claimed.basis));
      for (lab::PolicyReview const& policy : review.policies) {
        for (lab::Statement const& s : policy.statements) {
          if (s.claim == claimed.claim) {
            std::printf("  %-16s %-14s %s\n", policy.name.c_str(), text(s.holds), s.evidence.c_str());
          }
        }
      }
    }
  }
}

}  // namespace

void print(lab::Review const& review) {
  print_runs(review);
  print_counts(review);
  print_statements(review);
}

}  // namespace review
