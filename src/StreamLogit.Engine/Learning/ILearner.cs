using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Learning;

/// <summary>
/// The settings of a bank that share an update rule. Setting i of the rule is lane i of its rows; places beyond the last setting hold
/// numbers that nobody reads.
/// </summary>
internal interface ILearner
{
    /// <summary>Places in a row of settings.</summary>
    int RowLength { get; }

    /// <summary>The log-odds that <see cref="Score"/> computed last, one for every place.</summary>
    ReadOnlySpan<double> LogOdds { get; }

    /// <summary>Computes the log-odds of every setting. The slots must have been checked.</summary>
    /// <param name="x">The event.</param>
    /// <param name="offset">Log-odds that are added for every setting.</param>
    void Score(in EncodedVector x, double offset);

    /// <summary>Teaches every setting one label. The slots must have been marked.</summary>
    void Learn(in EncodedVector x, in Lesson lesson);

    /// <summary>Adds to each place of <paramref name="coefficients"/> the coefficients of that entry of x, weighted by setting.</summary>
    void AddCoefficients(in EncodedVector x, ReadOnlySpan<double> settingWeights, Span<double> coefficients);

    /// <summary>Pulls the coefficients of a slot towards 0. The slot must have been marked.</summary>
    /// <param name="slot">The slot.</param>
    /// <param name="left">The share of them that is left, 0 to 1.</param>
    void Pull(int slot, double left);

    double Intercept(int lane);

    double Coefficient(int slot, int lane);

    /// <summary>How many coefficients are not 0, without the intercept.</summary>
    long NonZeroCount(int lane);

    /// <summary>Lets a setting that has learned nothing start from these coefficients.</summary>
    void StartIntercept(int lane, double intercept);

    /// <summary>Lets a setting that has learned nothing start from these coefficients. The slot must have been marked.</summary>
    void StartCoefficient(int slot, int lane, double coefficient);

    /// <summary>Rows of settings that a slot has; the first holds the coefficients, before the scale of <see cref="SaveSetting"/>.</summary>
    int RowsPerSlot { get; }

    /// <summary>The rows of some slots, for saving and loading.</summary>
    Span<double> Rows(int slot, int count);

    /// <summary>Numbers that a setting has besides its rows: the intercept first, then the scale of its coefficients, then what the rule needs.</summary>
    int NumbersPerSetting { get; }

    void SaveSetting(int lane, Span<double> numbers);

    void LoadSetting(int lane, ReadOnlySpan<double> numbers);
}
