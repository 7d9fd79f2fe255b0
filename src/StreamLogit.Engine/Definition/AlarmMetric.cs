namespace StreamLogit.Engine.Definition;

/// <summary>What an alarm looks at.</summary>
public enum AlarmMetric
{
    /// <summary>Mean log-loss of the published probabilities, in nats.</summary>
    LogLoss,

    /// <summary>Log-loss over that of the base rate; above 1 the model does harm.</summary>
    LogLossRatio,

    /// <summary>Brier score.</summary>
    Brier,

    /// <summary>Labels 1 that came over those that were promised.</summary>
    ObservedToExpected,

    /// <summary>Spiegelhalter's Z; above 2 the Brier score is worse than promised.</summary>
    SpiegelhalterZ,

    /// <summary>Expected calibration error over ten groups of equal counts.</summary>
    CalibrationError,

    /// <summary>Calibration intercept (Cox 1958), 0 where the probabilities hold.</summary>
    CalibrationIntercept,

    /// <summary>Calibration slope (Cox 1958), 1 where the probabilities hold.</summary>
    CalibrationSlope,

    /// <summary>Area under the receiver operating characteristic.</summary>
    Auc,

    /// <summary>Share of labels that are 1.</summary>
    LabelRate,

    /// <summary>Mean published probability of labelled events.</summary>
    MeanProbability,

    /// <summary>Share of labelled alerts whose label is 1.</summary>
    Precision,

    /// <summary>Share of labels 1 whose event was an alert.</summary>
    Recall,

    /// <summary>Share of events that are alerts.</summary>
    AlertRate,

    /// <summary>Events scored.</summary>
    Events,

    /// <summary>Labels learned.</summary>
    Labels,

    /// <summary>Share of records that were rejected.</summary>
    RejectShare,

    /// <summary>Median of the time from an event to its label, in seconds.</summary>
    LabelDelaySeconds,

    /// <summary>Population stability index against the reference period, of the feature that moved most.</summary>
    Drift,

    /// <summary>Share of missing values, of the feature with the most.</summary>
    MissingShare,

    /// <summary>Share of values that no event had before, of the feature with the most.</summary>
    UnseenShare,

    /// <summary>Changes that the detectors found.</summary>
    Changes,
}
