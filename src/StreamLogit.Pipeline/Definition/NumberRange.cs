namespace StreamLogit.Pipeline.Definition;

/// <summary>The numbers that a key may hold; ends included.</summary>
/// <param name="Minimum">The smallest number.</param>
/// <param name="Maximum">The largest number.</param>
/// <param name="InWords">As messages say it: <c>a number above 0</c>.</param>
internal sealed record NumberRange(double Minimum, double Maximum, string InWords)
{
    public static NumberRange Positive { get; } = new(double.Epsilon, double.MaxValue, "a number above 0");

    public static NumberRange NotNegative { get; } = new(0, double.MaxValue, "a number, 0 or more");

    public static NumberRange PositiveToMillion { get; } = new(double.Epsilon, 1e6, "a number above 0, at most 1000000");

    public static NumberRange Any { get; } = new(double.MinValue, double.MaxValue, "a number");

    public static NumberRange PositiveToOne { get; } = new(double.Epsilon, 1, "a number above 0, at most 1");

    public static NumberRange ZeroToOne { get; } = new(0, 1, "a number from 0 to 1");

    public static NumberRange BetweenZeroAndOne { get; } = new(double.Epsilon, double.BitDecrement(1), "a number above 0 and below 1");

    public bool Contains(double number) => number >= Minimum && number <= Maximum;
}
