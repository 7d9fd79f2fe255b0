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

    /// <summary>Puts the intercept of every setting. Only before anything is learned.</summary>
    void StartAt(double intercept);

    /// <summary>Computes the log-odds of every setting. The slots must have been checked.</summary>
    void Score(in EncodedVector x);

    /// <summary>Teaches every setting one label. The slots must have been marked.</summary>
    /// <param name="x">The event.</param>
    /// <param name="label">0 or 1.</param>
    /// <param name="weight">Its importance, 0 or more.</param>
    /// <param name="missProbability">
    /// What every setting gives at present to the label that was not the case; empty when that is not known and must be computed.
    /// </param>
    void Learn(in EncodedVector x, int label, double weight, ReadOnlySpan<double> missProbability);

    /// <summary>Adds to each place of <paramref name="coefficients"/> the coefficients of that entry of x, weighted by setting.</summary>
    void AddCoefficients(in EncodedVector x, ReadOnlySpan<double> settingWeights, Span<double> coefficients);

    double Intercept(int lane);

    double Coefficient(int slot, int lane);

    /// <summary>Doubles that a slot takes.</summary>
    int DoublesPerSlot { get; }

    /// <summary>The rows of some slots, for saving and loading.</summary>
    Span<double> Rows(int slot, int count);

    /// <summary>Doubles that a setting has besides its rows.</summary>
    int DoublesPerSetting { get; }

    void SaveSetting(int lane, Span<double> numbers);

    void LoadSetting(int lane, ReadOnlySpan<double> numbers);
}
