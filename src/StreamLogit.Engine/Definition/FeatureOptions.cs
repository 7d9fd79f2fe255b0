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

    /// <summary>How a reason names the feature with the figure that it had for an event, or null where its name alone is used.</summary>
    public virtual ReasonWords? Words => null;
}
