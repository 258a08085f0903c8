#pragma once

#include <cstddef>
#include <thread>
#include <utility>
#include <vector>

#include <Eigen/Dense>

#include "exact/executor.hpp"
#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"
#include "ranking/random_draws.hpp"

namespace spinsieve::cases {

/// A positive semidefinite form of the given rank with random entries.
inline Eigen::MatrixXd random_form(RandomDraws& random, Eigen::Index n, Eigen::Index rank) {
  Eigen::MatrixXd half(n, rank);
  for (double& entry : half.reshaped()) entry = random.normal();
  return half * half.transpose();
}

inline std::vector<Eigen::MatrixXd> random_forms(RandomDraws& random, Eigen::Index n,
                                                 std::size_t points) {
  std::vector<Eigen::MatrixXd> forms;
  for (std::size_t s = 0; s < points; ++s)
    forms.push_back(random_form(random, n, 1 + static_cast<Eigen::Index>(s) % 2));
  return forms;
}

inline CandidateModel model_of(const std::vector<Eigen::MatrixXd>& forms) {
  CandidateModel model;
  model.forms = FormFamily(static_cast<std::size_t>(forms.front().rows()), forms);
  return model;
}

/// Points with these values and sigmas, one free scale unless told otherwise.
inline FitData data_of(const std::vector<double>& observed, const std::vector<double>& sigma,
                       std::vector<ScaleGroup> scales = {ScaleGroup{}}) {
  std::vector<MeasuredPoint> points(observed.size());
  for (std::size_t i = 0; i < points.size(); ++i) {
    points[i].observed = observed[i];
    points[i].sigma = sigma[i];
    points[i].label = "line " + std::to_string(i + 1);
  }
  return FitData(std::move(points), std::move(scales));
}

/// Data of the model at c with relative errors and seeded noise; factor scales the noise.
inline FitData simulated(RandomDraws& random, const CandidateModel& model, const Eigen::VectorXd& c,
                         double relative_error, double factor = 1) {
  const Eigen::VectorXd exact = model.forms.intensities(c);
  const double floor = 0.1 * relative_error * exact.maxCoeff();
  std::vector<double> observed;
  std::vector<double> sigma;
  for (const double value : exact) {
    sigma.push_back(relative_error * value + floor);
    observed.push_back(value + factor * sigma.back() * random.normal());
  }
  return data_of(observed, sigma);
}

/// Runs bodies on a few threads, in an order of its own.
class ThreadedExecutor : public Executor {
 public:
  explicit ThreadedExecutor(std::size_t threads) : threads_(threads) {}

  void for_each(std::size_t count, const std::function<void(std::size_t)>& body) override {
    std::vector<std::thread> pool;
    for (std::size_t t = 0; t < threads_; ++t)
      pool.emplace_back([&, t] {
        for (std::size_t i = count; i-- > 0;)
          if (i % threads_ == t) body(i);
      });
    for (std::thread& thread : pool) thread.join();
  }

 private:
  std::size_t threads_;
};

}  // namespace spinsieve::cases
