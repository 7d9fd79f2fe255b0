namespace StreamLogit.Engine.Definition;

/// <summary>One feature: how some fields of an event become entries of its sparse vector.</summary>
public abstract record FeatureOptions
{
    private protected FeatureOptions() { }

    /// <summary>The name under which the feature stands in reasons and reports.</summary>
    public abstract string Name { get; }

    /// <summary>How many coefficients of its own it has, apart from the hashed slots that values of categories share.</summary>
    public abstract int DenseCoefficients { get; }

    /// <summary>All that gives its slots their meaning: a saved state may only be taken up where it is the same.</summary>
    public virtual string Identity => $"{GetType().Name} {Name}";

    /// <summary>
    /// The time on the stream's clock, in microseconds, in which the coefficients of this feature lose half of their distance from 0, or from the warm start, in
    /// every setting and on top of what the setting does itself. 0, the default: never. A hashed slot goes by the feature whose value took it first.
    /// No part of <see cref="Identity"/>: a state goes on with another one, which counts from then on.
    /// </summary>
    public long ForgetHalfLifeMicroseconds { get; init; }

    /// <summary>How a reason names the feature with the figure that it had for an event, or null where its name alone is used.</summary>
    public virtual ReasonWords? Words => null;
}
