"""Tables, choices and constraints: one file per noun of the laboratory."""

from labrecords.models.audit import AuditChange, AuditCheckpoint, AuditEvent, AuditLeaf
from labrecords.models.batch import Batch, BatchState, Sample
from labrecords.models.calculation import Calculation, CalculationRequest, MonteCarloCheck
from labrecords.models.control_chart import ControlChart, ControlLimits
from labrecords.models.control_sample import ControlSample
from labrecords.models.endpoint_rule import CurveQuantity, EndpointRule
from labrecords.models.instrument import Instrument, InstrumentCalibration, InstrumentKind, UsedInstrument
from labrecords.models.investigation import Conclusion, Investigation, InvestigationState, Question
from labrecords.models.method import Method, MethodVersion, Quantity, Titration, VersionState
from labrecords.models.number import NumberSeries
from labrecords.models.product import Product, Specification, SpecificationLimit
from labrecords.models.replicate import Curve, ExclusionCause, Replicate, ReplicateKind
from labrecords.models.run import Run
from labrecords.models.signature import Meaning, Signature
from labrecords.models.standard import LotState, ReferenceStandard
from labrecords.models.standardization import Basis, RecordState, Standardization
from labrecords.models.stored_file import StoredFile
from labrecords.models.substance import Hazard, Substance
from labrecords.models.titrant import Titrant, TitrantLot
from labrecords.models.user import Role, User

__all__ = [
    "AuditChange",
    "AuditCheckpoint",
    "AuditEvent",
    "AuditLeaf",
    "Basis",
    "Batch",
    "BatchState",
    "Calculation",
    "CalculationRequest",
    "Conclusion",
    "ControlChart",
    "ControlLimits",
    "ControlSample",
    "Curve",
    "CurveQuantity",
    "EndpointRule",
    "ExclusionCause",
    "Hazard",
    "Instrument",
    "InstrumentCalibration",
    "InstrumentKind",
    "Investigation",
    "InvestigationState",
    "LotState",
    "Meaning",
    "Method",
    "MethodVersion",
    "MonteCarloCheck",
    "NumberSeries",
    "Product",
    "Quantity",
    "Question",
    "RecordState",
    "ReferenceStandard",
    "Replicate",
    "ReplicateKind",
    "Role",
    "Run",
    "Sample",
    "Signature",
    "Specification",
    "SpecificationLimit",
    "Standardization",
    "StoredFile",
    "Substance",
    "Titrant",
    "TitrantLot",
    "Titration",
    "UsedInstrument",
    "User",
    "VersionState",
]
