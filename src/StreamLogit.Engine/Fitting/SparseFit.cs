using System.Collections.Immutable;
using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Fitting;

/// <summary>A logistic regression with an L2 penalty. Immutable.</summary>
public sealed class SparseFit
{
    private readonly SparseColumns _columns;
    private readonly double[] _coefficients;

    internal SparseFit(SparseColumns columns, double[] coefficients, double intercept)
    {
        (_columns, _coefficients, Intercept) = (columns, coefficients, intercept);
    }

    /// <summary>How the fit ended: converged, one class or not converged.</summary>
    public required FitOutcome Outcome { get; init; }

    /// <summary>What the reader has to know, in plain sentences.</summary>
    public ImmutableArray<string> Findings { get; init; } = [];

    /// <summary>The log-odds of a row without entries.</summary>
    public double Intercept { get; }

    /// <summary>Columns that have a coefficient.</summary>
    public int ColumnCount => _coefficients.Length;

    /// <summary>The slots and coefficients of all columns.</summary>
    public IEnumerable<(int Slot, double Coefficient)> Coefficients
    {
        get
        {
            for (int column = 0; column < _coefficients.Length; column++) yield return (_columns.SlotOf(column), _coefficients[column]);
        }
    }

    /// <summary>Rows that were fitted.</summary>
    public required long Rows { get; init; }

    /// <summary>The sum of their weights.</summary>
    public required double Weight { get; init; }

    /// <summary>What their log-losses would sum up to at the share of ones among them, in nats.</summary>
    public required double BaseRateLogLoss { get; init; }

    /// <summary>The sum of their log-losses, in nats.</summary>
    public required double LogLoss { get; init; }

    /// <summary><see cref="LogLoss"/> with the penalty.</summary>
    public required double Objective { get; init; }

    /// <summary>Newton steps.</summary>
    public int Steps { get; init; }

    /// <summary>Passes over the rows.</summary>
    public int Passes { get; init; }

    /// <summary>The coefficient of a slot, 0 where no row used it.</summary>
    public double Coefficient(int slot) => _columns.TryFind(slot, out int column) && column < _coefficients.Length ? _coefficients[column] : 0;

    /// <summary>The log-odds of an event.</summary>
    public double LogOdds(in EncodedVector x)
    {
        double sum = Intercept;
        for (int i = 0; i < x.Slots.Length; i++) sum += Coefficient(x.Slots[i]) * x.Values[i];
        return sum;
    }

    internal double CoefficientOfColumn(int column) => _coefficients[column];

    internal void CopyTo(double[] at) => _coefficients.CopyTo(at, 0);
}
