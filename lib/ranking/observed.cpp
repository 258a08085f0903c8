#include "ranking/observed.hpp"

#include <utility>

namespace spinsieve {

FitData observed_data(std::span<const ObservationPlan> plans, std::vector<ScaleGroup> scales) {
  std::vector<MeasuredPoint> points;
  for (std::size_t m = 0; m < plans.size(); ++m)
    for (const ObservationGroup& group : plans[m].groups()) {
      MeasuredPoint point;
      point.observed = group.observed;
      point.sigma = group.sigma;
      point.kind = group.kind;
      point.scale_group = m;
      point.label = group.label;
      points.push_back(std::move(point));
    }
  return FitData(std::move(points), std::move(scales));
}

FormFamily observed_forms(std::size_t parameters, std::span<const std::vector<DataPoint>> points) {
  std::vector<Eigen::MatrixXd> forms;
  for (const std::vector<DataPoint>& measurement : points)
    for (const DataPoint& point : measurement) forms.push_back(point.form);
  return {parameters, forms};
}

}  // namespace spinsieve
