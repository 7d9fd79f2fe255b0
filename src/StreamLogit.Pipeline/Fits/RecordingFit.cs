using System.Collections.Immutable;
using StreamLogit.Engine;
using StreamLogit.Engine.Fitting;

namespace StreamLogit.Pipeline.Fits;

/// <summary>Fits the labelled events that an engine has encoded.</summary>
internal sealed class RecordingFit
{
    private const int MostDenseColumns = 1000;
    private const long MostDenseBytes = 4L << 30;
    private const int MostColumnsWithErrors = 2000;
    private readonly ScoringEngine _engine;
    private readonly SparseRows _rows;
    private readonly (int Slot, string Name, int Column)[] _columns;

    public RecordingFit(ScoringEngine engine, SparseRows rows)
    {
        (_engine, _rows) = (engine, rows);

        // A slot may have been used by events without a label only.
        _columns = [.. engine.UsedSlots.Select(s => (s.Slot, s.Name, Column: rows.Columns.TryFind(s.Slot, out int column) ? column : -1)).Where(s => s.Column >= 0)];
    }

    /// <exception cref="PipelineException">The table of the rows would be too large.</exception>
    public FitResult MaximumLikelihood()
    {
        double bytes = (double)_rows.Count * _columns.Length * sizeof(double);
        if (_columns.Length > MostDenseColumns || bytes > MostDenseBytes)
            throw new PipelineException(FormattableString.Invariant(
                $"maximum likelihood with {_columns.Length} coefficients on {_rows.Count} labelled events would take too much time and memory (at most {MostDenseColumns} coefficients and {MostDenseBytes >> 30} GiB): fit with a penalty, --l2 1"));

        // In the order of the features, so that of columns that determine each other the later ones are left out.
        var order = _columns.Select(c => c.Column).ToArray();
        var fit = Engine.Fitting.MaximumLikelihood.Fit(_rows.ToDense(order, [.. _columns.Select(c => c.Name)]));
        var estimates = fit.Coefficients.IsEmpty
            ? []
            : _columns.Select((c, i) => (c.Slot, Value: fit.Coefficients[i + 1].Estimate)).Where(c => !double.IsNaN(c.Value)).ToDictionary(c => c.Slot, c => c.Value);
        return new FitResult
        {
            Method = FitMethod.MaximumLikelihood,
            Outcome = fit.Outcome,
            Findings = fit.Findings,
            Coefficients = fit.Coefficients,
            Rows = fit.Rows,
            Weight = fit.Weight,
            Deviance = fit.Deviance,
            NullDeviance = fit.NullDeviance,
            Model = fit.Outcome == FitOutcome.Converged
                ? _engine.ToFittedModel(fit.Coefficients[0].Estimate, slot => estimates.GetValueOrDefault(slot))
                : null,
        };
    }

    public FitResult Penalised(double l2)
    {
        var options = new PenaltyOptions { L2 = l2 };
        var fit = PenalisedLikelihood.Fit([_rows], _rows.Columns, options);
        bool hasConverged = fit.Outcome == FitOutcome.Converged;
        double[]? errors = hasConverged && fit.ColumnCount <= MostColumnsWithErrors ? PenalisedInformation.StandardErrors([_rows], fit, options) : null;
        CoefficientEstimate Estimate(string name, double value, int column) => new(name, value, errors?[column] ?? double.NaN, double.NaN, double.NaN);
        ImmutableArray<CoefficientEstimate> coefficients =
        [
            Estimate(CoefficientEstimate.Intercept, fit.Intercept, fit.ColumnCount),
            .. _columns.Select(c => Estimate(c.Name, fit.Coefficient(c.Slot), c.Column)),
        ];
        return new FitResult
        {
            Method = FitMethod.Penalised,
            Outcome = fit.Outcome,
            Findings = fit.Findings,
            Coefficients = hasConverged ? coefficients : [],
            Rows = fit.Rows,
            Weight = fit.Weight,
            Deviance = hasConverged ? 2 * fit.LogLoss : double.NaN,
            NullDeviance = hasConverged ? 2 * fit.BaseRateLogLoss : double.NaN,
            Model = hasConverged ? _engine.ToFittedModel(fit.Intercept, fit.Coefficient) : null,
        };
    }
}
